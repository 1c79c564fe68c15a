import { type ComponentProps, type ReactNode, useId } from 'react';

interface Naming {
  id: string;
  'aria-describedby': string | undefined;
  'aria-invalid': boolean | undefined;
}

export interface FieldProps {
  label: ReactNode;
  hint?: ReactNode;
  error?: string | undefined;
  className?: string;
  /** Hides the label from sight only, where the place already says it. */
  isLabelHidden?: boolean;
}

/** Label above, hint and error below, both tied to the control. */
export function Field({
  label,
  hint,
  error,
  className = '',
  isLabelHidden = false,
  children,
}: FieldProps & { children: (naming: Naming) => ReactNode }) {
  const id = useId();
  const describedBy = [hint ? `${id}-hint` : '', error ? `${id}-error` : ''].filter(Boolean).join(' ');
  return (
    <div className={className}>
      <label htmlFor={id} className={isLabelHidden ? 'sr-only' : 'mb-1.5 block text-small font-[560]'}>
        {label}
      </label>
      {children({
        id,
        'aria-describedby': describedBy === '' ? undefined : describedBy,
        'aria-invalid': error ? true : undefined,
      })}
      {hint && (
        <p id={`${id}-hint`} className="mt-1 text-small text-soft">
          {hint}
        </p>
      )}
      {error && (
        <p id={`${id}-error`} className="mt-1 text-small font-medium text-madder">
          {error}
        </p>
      )}
    </div>
  );
}

type Control<Tag extends 'input' | 'select' | 'textarea'> = FieldProps & Omit<ComponentProps<Tag>, 'id' | 'className'>;

export function TextField({ label, hint, error, className, isLabelHidden, ...rest }: Control<'input'>) {
  return (
    <Field label={label} hint={hint} error={error} className={className} isLabelHidden={isLabelHidden}>
      {(naming) => <input type="text" className="blank" {...rest} {...naming} />}
    </Field>
  );
}

export function TextArea({ label, hint, error, className, isLabelHidden, ...rest }: Control<'textarea'>) {
  return (
    <Field label={label} hint={hint} error={error} className={className} isLabelHidden={isLabelHidden}>
      {(naming) => <textarea rows={3} className="blank block" {...rest} {...naming} />}
    </Field>
  );
}

export function Select({ label, hint, error, className, isLabelHidden, children, ...rest }: Control<'select'>) {
  return (
    <Field label={label} hint={hint} error={error} className={className} isLabelHidden={isLabelHidden}>
      {(naming) => (
        <select className="blank" {...rest} {...naming}>
          {children}
        </select>
      )}
    </Field>
  );
}

export function Checkbox({
  label,
  hint,
  className = '',
  ...rest
}: Omit<ComponentProps<'input'>, 'id' | 'type'> & {
  label: ReactNode;
  hint?: ReactNode;
}) {
  const id = useId();
  return (
    <div className={className}>
      <label className="inline-flex items-baseline gap-2">
        <input
          type="checkbox"
          className="h-3.5 w-3.5 translate-y-[2px] accent-moss"
          aria-describedby={hint ? `${id}-hint` : undefined}
          {...rest}
        />
        <span>{label}</span>
      </label>
      {hint && (
        <p id={`${id}-hint`} className="pl-[22px] text-small text-soft">
          {hint}
        </p>
      )}
    </div>
  );
}
