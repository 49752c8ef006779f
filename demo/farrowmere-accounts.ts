import type { Role } from '../shared/domain/permission.ts';

export interface DemoAccount {
  username: string;
  name: string;
  email: string;
  /** One line for the sign-in page. */
  does: string;
  /** Roles held at sites. */
  siteRoles: readonly { siteId: string; role: Role }[];
  /** Roles held for the installation. */
  installationRoles: readonly Role[];
}

/** The password of every account of the demo. */
export const demoPassword = 'demo';

export const generalId = 'farrowmere-general';
export const saltbyId = 'saltby-bay';

function atBoth(role: Role): DemoAccount['siteRoles'] {
  return [generalId, saltbyId].map((siteId) => ({ siteId, role }));
}

/** The demo's people. All names are invented. */
export const demoAccounts: readonly DemoAccount[] = [
  {
    username: 'charge',
    name: 'Ines Hartwell',
    email: 'ines.hartwell@farrowmere.example',
    does: 'Charge nurse at both sites',
    siteRoles: atBoth('charge'),
    installationRoles: [],
  },
  {
    username: 'operations',
    name: 'Tomas Okoro-Lind',
    email: 'tomas.okoro-lind@farrowmere.example',
    does: 'Operations manager at both sites',
    siteRoles: atBoth('operations'),
    installationRoles: [],
  },
  {
    username: 'operations2',
    name: 'Petra Vance',
    email: 'petra.vance@farrowmere.example',
    does: 'Operations manager at both sites; can approve what the other fitted',
    siteRoles: atBoth('operations'),
    installationRoles: [],
  },
  {
    username: 'steward',
    name: 'Wen Aldous',
    email: 'wen.aldous@farrowmere.example',
    does: 'Data steward at both sites',
    siteRoles: atBoth('steward'),
    installationRoles: [],
  },
  {
    username: 'executive',
    name: 'Marguerite Sol',
    email: 'marguerite.sol@farrowmere.example',
    does: 'Executive of both sites',
    siteRoles: atBoth('executive'),
    installationRoles: [],
  },
  {
    username: 'charge2',
    name: 'Dilip Marrow',
    email: 'dilip.marrow@saltby.example',
    does: 'Charge nurse at Saltby Bay only',
    siteRoles: [{ siteId: saltbyId, role: 'charge' }],
    installationRoles: [],
  },
  {
    username: 'admin',
    name: 'Kirsa Quayle',
    email: 'kirsa.quayle@farrowmere.example',
    does: 'Administrator, with no clinical or planning role',
    siteRoles: [],
    installationRoles: ['administrator'],
  },
  {
    username: 'nobody',
    name: 'Jory Penn',
    email: 'jory.penn@farrowmere.example',
    does: 'No role yet',
    siteRoles: [],
    installationRoles: [],
  },
];
