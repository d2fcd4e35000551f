/**
 * Words that guessers of our passwords try first, beside the common ones of everybody: of the product, the field and its
 * people.
 */
export const COMMON_WORDS =
  `password passwort passphrase pass1234 letmein welcome admin administrator login secret default changeme
  qwerty qwertz azerty asdf asdfgh zxcv iloveyou sunshine princess dragon monkey football baseball master
  shadow superman batman trustno1 michael jordan hunter summer winter spring autumn monday friday january
  february march april august september october november december love money freedom whatever computer
  internet server database correct horse battery staple hello world google test user guest root temp
  beadline helium superfluid vortex quantum tracer cryostat laboratory physics science research university
  experiment annotator analyst principal investigator experimentalist microscope camera recording tangle
  temperature laser liquid lambda line lines turbulence turbulent counterflow cooldown dewar reconnection velocity particle abcd abcdef 12345678 1234567 123456 12345
  1234 0000 1111 2024 2025 2026 please open enter access private account online mypassword thisismy`.split(
    /\s+/,
  );

/** Keys that lie side by side. */
export const KEY_ROWS = [
  'qwertyuiop',
  'qwertzuiop',
  'azertyuiop',
  'asdfghjkl',
  'zxcvbnm',
  'yxcvbnm',
  '1234567890',
  'abcdefghijklmnopqrstuvwxyz',
];
