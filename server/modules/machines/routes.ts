import { DescribeMachine, MakeMachine, RetireMachine } from '../../../shared/contract/machines.ts'
import { route, type RouteSpec } from '../../http/route.ts'
import { describeMachine } from './describe-machine.ts'
import { onMachine } from './locate.ts'
import { makeMachine } from './make-machine.ts'
import { presentBus } from './present-bus.ts'
import { presentFamily } from './present-family.ts'
import { presentJoint } from './present-joint.ts'
import { presentMachine, presentMachines } from './present.ts'
import { retireMachine } from './retire-machine.ts'

export const machineRoutes: readonly RouteSpec[] = [
  route({
    method: 'get',
    path: '/machines',
    summary: 'machines',
    access: 'read',
    benchKey: true,
    handle: async ({ em, held }) => ({ body: await presentMachines(em, held) }),
  }),
  route({
    method: 'post',
    path: '/machines',
    summary: 'make a machine',
    access: 'make machines',
    body: MakeMachine,
    handle: (call) =>
      call.act(async (em) => {
        const machine = await makeMachine(em, { ...call.body, person: call.person, now: call.now })
        return { status: 201, body: await presentMachine(em, machine, call.held) }
      }),
  }),
  route({
    method: 'get',
    path: '/machines/:machine',
    summary: 'a machine',
    access: 'read',
    benchKey: true,
    place: onMachine,
    handle: async ({ em, place, held }) => ({ body: await presentMachine(em, place.found, held) }),
  }),
  route({
    method: 'patch',
    path: '/machines/:machine',
    summary: 'describe a machine',
    access: 'make machines',
    place: onMachine,
    body: DescribeMachine,
    handle: (call) =>
      call.act(async (em) => {
        const machine = await describeMachine(em, { ...call.body, machine: call.place.found, person: call.person, now: call.now })
        return { body: await presentMachine(em, machine, call.held) }
      }),
  }),
  route({
    method: 'post',
    path: '/machines/:machine/retire',
    summary: 'retire a machine',
    access: 'make machines',
    place: onMachine,
    body: RetireMachine,
    handle: (call) =>
      call.act(async (em) => {
        const machine = await retireMachine(em, { machine: call.place.found, name: call.body.name, person: call.person, now: call.now })
        return { body: await presentMachine(em, machine, call.held) }
      }),
  }),
  route({
    method: 'get',
    path: '/machines/:machine/joints/:joint',
    summary: 'a joint with its values',
    access: 'read',
    benchKey: true,
    place: onMachine,
    handle: async ({ em, place, params }) => ({ body: await presentJoint(em, place.found, params.joint) }),
  }),
  route({
    method: 'get',
    path: '/machines/:machine/families/:family',
    summary: 'a family with its drive train',
    access: 'read',
    benchKey: true,
    place: onMachine,
    handle: async ({ em, place, params }) => ({ body: await presentFamily(em, place.found, params.family) }),
  }),
  route({
    method: 'get',
    path: '/machines/:machine/buses/:bus',
    summary: 'a bus with its taps',
    access: 'read',
    benchKey: true,
    place: onMachine,
    handle: async ({ em, place, params }) => ({ body: await presentBus(em, place.found, params.bus) }),
  }),
]
