import { useTranslation } from 'react-i18next';
import type { PersonRow } from '../../../../shared/contracts/settings.ts';
import { Button } from '../../../components/Button.tsx';
import { Table } from '../../../components/Table.tsx';
import { useCategories } from '../../../lib/categories.ts';
import { formatInstant } from '../../../lib/format.ts';
import { useSession } from '../../../lib/session.ts';

type Step = (person: PersonRow) => void;

export function PeopleTable({
  people,
  onChangeRoles,
  onDisable,
  onEnable,
  onRenewLink,
}: {
  people: PersonRow[];
  onChangeRoles: Step;
  onDisable: Step;
  onEnable: Step;
  onRenewLink: Step;
}) {
  const { t } = useTranslation('settings');
  const me = useSession().person.id;
  return (
    <Table caption={t('people.caption')}>
      <thead>
        <tr>
          <th scope="col">{t('people.name')}</th>
          <th scope="col">{t('people.roles')}</th>
          <th scope="col">{t('people.state')}</th>
          <th scope="col">{t('people.seen')}</th>
          <th scope="col">
            <span className="sr-only">{t('people.does')}</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {people.map((person) => (
          <tr key={person.id} className={person.isActive ? '' : 'text-soft'}>
            <th scope="row">
              <span className="font-[560]">{person.name}</span>
              {person.id === me && <span className="text-soft"> ({t('people.yourself')})</span>}
              <span className="block text-small text-soft">{person.email}</span>
            </th>
            <td>
              <Roles person={person} />
            </td>
            <td>{t(!person.isActive ? 'people.disabled' : person.hasAccepted ? 'people.active' : 'people.invited')}</td>
            <td className="whitespace-nowrap">
              {person.lastSeenAt === null ? t('people.never') : formatInstant(person.lastSeenAt)}
            </td>
            <td className="text-right">
              <span className="inline-flex flex-wrap justify-end gap-x-4">
                <Button
                  variant="text"
                  className="!py-0"
                  aria-label={t('people.changeNamed', { name: person.name })}
                  onClick={() => onChangeRoles(person)}
                >
                  {t('people.change')}
                </Button>
                {person.isActive && (
                  <Button
                    variant="text"
                    className="!py-0"
                    aria-label={t('people.newLinkNamed', { name: person.name })}
                    onClick={() => onRenewLink(person)}
                  >
                    {t('people.newLink')}
                  </Button>
                )}
                {person.id !== me &&
                  (person.isActive ? (
                    <Button
                      variant="text"
                      className="!py-0"
                      aria-label={t('people.disableNamed', { name: person.name })}
                      onClick={() => onDisable(person)}
                    >
                      {t('people.disable')}
                    </Button>
                  ) : (
                    <Button
                      variant="text"
                      className="!py-0"
                      aria-label={t('people.enableNamed', { name: person.name })}
                      onClick={() => onEnable(person)}
                    >
                      {t('people.enable')}
                    </Button>
                  ))}
              </span>
            </td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

function Roles({ person }: { person: PersonRow }) {
  const { t } = useTranslation('settings');
  const { categories } = useCategories();
  return (
    <>
      {person.assignments.map(({ role, categoryId }, index) => (
        <span key={index} className="block">
          {t(`common:role.${role}`)}
          <span className="text-soft">
            {', '}
            {categoryId === null
              ? t('people.allCategories')
              : (categories.find(({ id }) => id === categoryId)?.name ?? `#${categoryId}`)}
          </span>
        </span>
      ))}
      {person.isDataSteward && <span className="block">{t('people.steward')}</span>}
    </>
  );
}
