import type { ComponentProps } from 'react';
import { Link, type LinkProps } from 'react-router-dom';

export type ButtonVariant = 'solid' | 'quiet' | 'text';

const shapes: Record<ButtonVariant, string> = {
  solid:
    'h-8 rounded-btn border border-moss bg-moss px-4 font-semibold text-on-moss hover:brightness-110 disabled:border-line disabled:bg-fold disabled:text-soft',
  quiet:
    'h-8 rounded-btn border border-moss px-4 font-semibold text-moss hover:bg-moss-tint disabled:border-line disabled:text-soft',
  text: 'act py-1 disabled:text-soft disabled:no-underline',
};

const shapeOf = (variant: ButtonVariant) =>
  `inline-flex items-center justify-center gap-2 whitespace-nowrap text-body disabled:cursor-not-allowed ${shapes[variant]}`;

export interface ButtonProps extends ComponentProps<'button'> {
  variant?: ButtonVariant;
}

export function Button({ variant = 'solid', type = 'button', className = '', ...rest }: ButtonProps) {
  return <button type={type} className={`${shapeOf(variant)} ${className}`} {...rest} />;
}

export function ButtonLink({ variant = 'solid', className = '', ...rest }: LinkProps & { variant?: ButtonVariant }) {
  return <Link className={`${shapeOf(variant)} ${className}`} {...rest} />;
}

/** A link that leads on. */
export function ActLink({ className = '', ...rest }: LinkProps) {
  return <Link className={`act ${className}`} {...rest} />;
}
