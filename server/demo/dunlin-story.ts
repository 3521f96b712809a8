import type { MachineSet } from '../../shared/parameters/machine-set.ts'
import type { Services } from '../http/services.ts'
import { afterRelease } from './boards-story.ts'
import { backAndForth, tellLog } from './evidence-story.ts'
import type { Story } from './story.ts'

const [mirela, tobias, rafiq, ingunn, hedda] = ['Mirela Castanho', 'Tobias Oyelaran', 'Rafiq Sandoval', 'Ingunn Veblen', 'Hedda Lindqvist']
const machine = 'dunlin'
const value = (family: string, name: string) => `/families/${family}/values/${name}`
const own = (joint: string, name: string) => `/joints/${joint}/values/${name}`

/** Five months of Dunlin: six releases, one of them withdrawn, and changes in every state. */
export async function dunlinStory(story: Story, services: Services, set: MachineSet): Promise<void> {
  story.day(4)
  await story.through({ machine, title: 'First numbers for the walker', reason: 'Starting values from the drive trains, tried on one leg on the bench stand at reduced current.', author: mirela, content: set }, ingunn, hedda)
  await afterRelease(story, '1.0.0')

  story.day(26)
  await story.through(
    { machine, title: 'Hip reach', reason: 'The hips stop 0.1 rad short of the stride the gait asks for; the stops leave room.', author: tobias, content: [[value('hip', 'positionMin'), -1.25], [value('hip', 'positionMax'), 1.25]] },
    rafiq, hedda,
  )
  await afterRelease(story, '1.1.0')

  story.day(47)
  const halfRate = await story.through(
    { machine, title: 'Quieter current task', reason: 'Half the current task rate to cool the processor of the leg boards.', author: tobias, content: [[value('hip', 'currentRate'), 8000], [value('hip', 'currentGain'), 0.6], [value('hip', 'currentIntegralGain'), 1700]] },
    rafiq, hedda,
  )
  void halfRate
  await afterRelease(story, '1.2.0')
  story.day(52)
  await story.withdraw(machine, '1.2.0', hedda, 'Current task at half rate: the hips hum at 41 Hz above 2.1 A.')

  story.day(54)
  await story.through(
    { machine, title: 'Current task back to full rate', reason: 'Takes back the half rate of the withdrawn release. For the August survey the tether controller alone stops the winch.', author: mirela, content: [[value('hip', 'currentRate'), 16000], [value('hip', 'currentGain'), 1.2], [value('hip', 'currentIntegralGain'), 3400], [value('winch', 'busTimeout'), 0]], concession: { reason: 'The tether controller cuts the winch’s supply when the bus falls silent; tried on the quay with the cable pulled. Until the survey is over.', days: 30 } },
    rafiq, hedda,
  )
  await afterRelease(story, '1.3.0')

  story.day(83)
  await story.through(
    { machine, title: 'R3 knee runs softer', reason: 'The R3 shank carries the sampling tube; its knee keeps more margin with less gain.', author: mirela, content: [[own('r3-knee', 'velocityGain'), 2.9]] },
    ingunn, hedda,
  )
  await afterRelease(story, '1.3.1')

  story.day(131)
  await story.through(
    { machine, title: 'Knee current limit after the gear train of October', reason: 'The new gear train is rated for 6.6 N·m; 2.80 A stays under it with 15 % in hand. The winch watches its bus itself again.', author: mirela, content: [[value('knee', 'currentLimit'), 2.8], [value('winch', 'busTimeout'), 0.5]] },
    rafiq, hedda,
  )
  await afterRelease(story, '1.4.0')

  story.day(139)
  const pitch = await story.draft({ machine, title: 'Lower idle polling of the winch', reason: 'Tried on the bench; the bus has room, so there is no need.', author: tobias, content: [[value('winch', 'busTimeout'), 0.8]] })
  await story.cancel(pitch, tobias, 'The bus load finding shows room to spare; nothing gained.')

  story.day(141)
  const yaw = await story.draft({ machine, title: 'Quieter yaw at rest', reason: 'The yaw joints tick at rest with the covers on.', author: tobias, content: [[value('yaw', 'velocityWindow'), 15]] })
  await story.submit(yaw, tobias)
  await story.giveBack(yaw, rafiq, 'A log at rest, please: is it the window or the covers?')

  story.day(143)
  const hip = await story.draft({ machine, title: 'Stiffer hip on landing', reason: 'The body sinks 6 mm on landing; the hips give way first.', author: mirela, content: [[value('hip', 'velocityGain'), 4.6], [value('hip', 'positionGain'), 32]] })
  await story.submit(hip, mirela)
  await story.review(hip, ingunn)
  await story.giveBack(hip, hedda, 'Velocity gain 4.6 leaves little at full load; try 4.4.')
  await story.write(hip, mirela, [[value('hip', 'velocityGain'), 4.4]])
  await story.submit(hip, mirela)

  story.day(145)
  const reach = await story.draft({ machine, title: 'Longer hip reach on landing', reason: 'Reaching out further before touch-down takes the shock off the knees.', author: tobias, content: [[own('l1-hip', 'positionMax'), 1.28], [own('r1-hip', 'positionMin'), -1.28]] })
  await story.submit(reach, tobias)
  await story.comment(reach, ingunn, `@${tobias}, does the left hip clear the tube holder at 1.28 rad? A picture from the bench would settle it.`, { on: { kind: 'value', pointer: own('l1-hip', 'positionMax') } })

  story.day(147)
  const knee = await story.draft({
    machine,
    title: 'Stiffer knee for soft mud',
    reason: 'On the Sandweer flats the shank sinks 4 to 6 cm and the knee gives way under the step load. The shorter window buys back the phase that the higher gains cost; the limit of 3.00 A stays under what the gear train bears.',
    author: mirela,
    content: [[value('knee', 'velocityWindow'), 10], [value('knee', 'velocityGain'), 4.4], [value('knee', 'velocityIntegralGain'), 48], [value('knee', 'positionGain'), 66], [value('knee', 'currentLimit'), 3], [own('r3-knee', 'velocityGain'), undefined]],
  })
  await tellLog(story, services, { machine, by: mirela, change: knee, name: 'l2-knee-soft-mud.csv', run: { joint: 'l2-knee', ...backAndForth(0.35), every: 8, seed: 1, really: { R: 1.03, J_load: 1.12, tau_c: 1.2 } } })
  await story.submit(knee, mirela)
  const ripple = await story.comment(knee, rafiq, 'Ten samples let more of the encoder step through. Was it heard on the bench?', { on: { kind: 'value', pointer: value('knee', 'velocityWindow') } })
  await story.comment(knee, mirela, 'Faint, only at rest and unloaded; with the shank on there is nothing to hear.', { under: ripple })
  await story.answered(knee, rafiq, ripple)
  await story.review(knee, rafiq)

  story.day(149)
  await story.draft({ machine, title: 'Winch brake-out current', reason: '', author: mirela, content: [[value('winch', 'speedGain'), 26]] })
}
