let audio: AudioContext | null = null

/** A short tone, as loud as a wrist watch. Silent where the browser has not let the page sound yet. */
export function beep(): void {
  audio ??= new AudioContext()
  if (audio.state === 'suspended') void audio.resume()
  const tone = audio.createOscillator()
  const volume = audio.createGain()
  const start = audio.currentTime
  tone.frequency.value = 880
  volume.gain.setValueAtTime(0, start)
  volume.gain.linearRampToValueAtTime(0.15, start + 0.02)
  volume.gain.linearRampToValueAtTime(0, start + 0.3)
  tone.connect(volume).connect(audio.destination)
  tone.start(start)
  tone.stop(start + 0.32)
}
