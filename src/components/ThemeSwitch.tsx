import { useTheme } from '../lib/theme.ts';

/** Names the theme it switches to. */
export function ThemeSwitch({ className }: { className?: string }) {
  const { theme, chooseTheme } = useTheme();
  return (
    <button
      type="button"
      className={className ?? 'link min-h-11 cursor-pointer font-semibold text-ink2'}
      onClick={() => chooseTheme(theme === 'dark' ? 'light' : 'dark')}
    >
      {theme === 'dark' ? 'Day theme' : 'Night theme'}
    </button>
  );
}
