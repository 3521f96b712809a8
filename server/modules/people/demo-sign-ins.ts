import type { Role } from '../../../shared/contract/people.ts'

export interface DemoSignIn {
  name: string
  email: string
  password: string
  /** held on all machines */
  roles: Role[]
}

const signIn = (name: string, password: string, ...roles: Role[]): DemoSignIn => ({ name, email: `${name.toLowerCase().replace(' ', '.')}@dunlin.example`, password, roles })

/** The invented people of the demo workplace. Shown on the sign-in page in demo mode; their passwords are refused in a real workplace. */
export const demoSignIns: readonly DemoSignIn[] = [
  signIn('Mirela Castanho', 'demo only mudflat knee', 'controls engineer'),
  signIn('Tobias Oyelaran', 'demo only seed sorter', 'controls engineer'),
  signIn('Rafiq Sandoval', 'demo only second look', 'peer reviewer', 'release manager'),
  signIn('Ingunn Veblen', 'demo only bench lamp', 'peer reviewer', 'builder'),
  signIn('Hedda Lindqvist', 'demo only last word', 'release manager', 'builder'),
  signIn('Pascoe Adeyemi', 'demo only torque wrench', 'builder'),
  signIn('Yuna Brandt', 'demo only field glass', 'observer'),
  signIn('Silvan Okoro', 'demo only spare keys', 'administrator'),
]

export const isDemoPassword = (password: string) => demoSignIns.some((d) => d.password === password)
