import { Checkbox } from '@/components/ui/choice';
import { ROLE_NAMES, ROLES, type Role } from '@/lib/access';

/** Roles of a member, any number of them. */
export function RolesChoice({
  roles,
  onChange,
}: {
  roles: readonly Role[];
  onChange: (roles: Role[]) => void;
}) {
  return (
    <fieldset className="flex flex-col gap-1">
      <legend className="pb-1 text-small text-ink-2">Roles</legend>
      {ROLES.map((role) => (
        <Checkbox
          key={role}
          label={ROLE_NAMES[role]}
          checked={roles.includes(role)}
          onChange={(event) =>
            onChange(event.target.checked ? [...roles, role] : roles.filter((other) => other !== role))
          }
        />
      ))}
    </fieldset>
  );
}
