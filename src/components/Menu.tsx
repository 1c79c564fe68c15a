import { DropdownMenu } from 'radix-ui';
import type { ReactNode } from 'react';
import { CaretMark } from './marks.tsx';

/** A button that opens a short list. Not modal, so that the page behind it keeps its scroll. */
export function Menu({
  trigger,
  label,
  children,
  align = 'start',
}: {
  trigger: ReactNode;
  label?: string;
  children: ReactNode;
  align?: 'start' | 'end';
}) {
  return (
    <DropdownMenu.Root modal={false}>
      <DropdownMenu.Trigger
        aria-label={label}
        className="inline-flex items-center gap-1.5 whitespace-nowrap hover:text-moss"
      >
        {trigger}
        <CaretMark />
      </DropdownMenu.Trigger>
      <DropdownMenu.Portal>
        <DropdownMenu.Content
          align={align}
          sideOffset={8}
          className="z-50 min-w-[180px] border border-ink bg-sheet py-1 text-body text-ink"
        >
          {children}
        </DropdownMenu.Content>
      </DropdownMenu.Portal>
    </DropdownMenu.Root>
  );
}

const itemShape = 'flex cursor-pointer items-center gap-2 px-4 py-1.5 outline-none data-[highlighted]:bg-moss-tint';

export function MenuItem({ onSelect, children }: { onSelect: () => void; children: ReactNode }) {
  return (
    <DropdownMenu.Item className={itemShape} onSelect={onSelect}>
      {children}
    </DropdownMenu.Item>
  );
}

/** One of several, the taken one marked. */
export function MenuChoice({
  value,
  onChange,
  options,
}: {
  value: string;
  onChange: (value: string) => void;
  options: readonly { value: string; label: string }[];
}) {
  return (
    <DropdownMenu.RadioGroup value={value} onValueChange={onChange}>
      {options.map((option) => (
        <DropdownMenu.RadioItem key={option.value} value={option.value} className={itemShape}>
          <span className="w-3" aria-hidden="true">
            <DropdownMenu.ItemIndicator>
              <svg width="10" height="8" viewBox="0 0 10 8">
                <path d="M1 4l2.6 2.8L9 1" fill="none" stroke="var(--moss)" strokeWidth="1.6" />
              </svg>
            </DropdownMenu.ItemIndicator>
          </span>
          {option.label}
        </DropdownMenu.RadioItem>
      ))}
    </DropdownMenu.RadioGroup>
  );
}

export function MenuRule() {
  return <DropdownMenu.Separator className="my-1 border-t border-line" />;
}
