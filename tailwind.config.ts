import type { Config } from 'tailwindcss';

/** The dye pot: the only colours of the product. */
export default {
  content: ['./src/**/*.{html,svelte,ts}'],
  theme: {
    extend: {
      colors: {
        undyed: '#F6F1E7',
        bleached: '#FFFDF8',
        charcoal: '#23262B',
        ash: '#6E6A62',
        hem: '#DDD5C6',
        woad: '#2F5D7C',
        weld: '#C9971C',
        madder: '#A63A2B',
        lichen: '#6A4C7D',
        fern: '#4B7046',
        walnut: '#6B4A32'
      },
      fontFamily: {
        sans: ['"IBM Plex Sans"', 'system-ui', 'sans-serif']
      },
      fontSize: {
        small: ['0.875rem', '1.25rem'],
        body: ['1rem', '1.5rem'],
        title: ['1.25rem', '1.75rem'],
        loud: ['1.75rem', '2.125rem']
      }
    }
  }
} satisfies Config;
