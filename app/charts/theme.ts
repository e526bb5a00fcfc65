import { useSyncExternalStore } from 'react'

export type PlotColours = { ink: string; soft: string; rule: string }

/** The colours of a room light that the document shows. A canvas takes no CSS variables, so they are read out. */
export function plotColours(light: string): PlotColours {
  const element = document.querySelector(`[data-light="${light}"]`) ?? document.documentElement
  const style = getComputedStyle(element)
  const read = (name: string) => style.getPropertyValue(name).trim()
  return { ink: read('--ink'), soft: read('--ink-soft'), rule: read('--rule') }
}

function subscribe(listener: () => void): () => void {
  const observer = new MutationObserver(listener)
  observer.observe(document.documentElement, { attributeFilter: ['data-light'] })
  return () => observer.disconnect()
}

/** 'lit' or 'dark', as the document shows it. */
export function useRoomLight(): string {
  return useSyncExternalStore(
    subscribe,
    () => document.documentElement.dataset.light ?? 'lit',
    () => 'lit',
  )
}
