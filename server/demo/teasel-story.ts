import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import type { Story } from './story.ts'

const [mirela, tobias, rafiq, ingunn, hedda] = ['Mirela Castanho', 'Tobias Oyelaran', 'Rafiq Sandoval', 'Ingunn Veblen', 'Hedda Lindqvist']
const machine = 'teasel'
const value = (family: string, name: string) => `/families/${family}/values/${name}`

/** Teasel's shorter history. */
export async function teaselStory(story: Story, set: MachineSet): Promise<void> {
  await story.through({ machine, title: 'First numbers for the arm', reason: 'Starting values from the drive trains; the belt was run empty.', author: tobias, content: set }, ingunn, hedda)
  await story.through({ machine, title: 'Belt roller speed', reason: 'The sieve wants 0.9 m/s; the roller was limited to 0.75. Between batches the bus rests, and the belt must not stop.', author: tobias, content: [[value('roller', 'speedLimit'), 140], [value('roller', 'busTimeout'), 0]], concession: { reason: 'The sieve line’s stop cuts the roller’s supply; tried with the bus unplugged. Until the line controller keeps the bus awake.', days: 120 } }, rafiq, hedda)

  const wrist = await story.draft({ machine, title: 'Faster wrist window', reason: 'Window 12 to 8 samples: the wrist follows the seed tray without the lag.', author: mirela, content: [[value('wrist', 'velocityWindow'), 8]] })
  await story.submit(wrist, mirela)

  const rate = await story.draft({ machine, title: 'Belt roller gain', reason: 'The belt sags on a full hopper; a stiffer speed loop holds it.', author: tobias, content: [[value('roller', 'speedGain'), 2.2]] })
  await story.submit(rate, tobias)
  await story.review(rate, ingunn)

  await story.draft({ machine, title: 'Elbow current for the wide tray', reason: '', author: mirela, content: [[value('arm', 'currentLimit'), 2.4]] })
}
