// The package has no types of its own; this is what the tests use of it.
declare module 'datapackage' {
  export class Profile {
    static load(name: string): Promise<Profile>;
    validate(descriptor: object): { valid: boolean; errors: Error[] };
  }
}
