import { token as asWritten } from '../charts/tokens.ts'
import { monaco } from './monaco-setup.ts'

/** Six digits: a build may shorten #FFFFFF to #fff, which the editor refuses. */
const token = (name: string) => asWritten(name).replace(/^#(.)(.)(.)$/, '#$1$1$2$2$3$3')

/** The editor in the page's colours: keys in ink, text in slate, numbers in brass, comments quiet. */
export function showTheme(key: string): string {
  const bare = (name: string) => token(name).replace('#', '')
  const name = `detent-${key}`
  monaco.editor.defineTheme(name, {
    base: key === 'dark' ? 'vs-dark' : 'vs',
    inherit: true,
    rules: [
      { token: '', foreground: bare('ink') },
      { token: 'string.key.json', foreground: bare('ink') },
      { token: 'string.value.json', foreground: bare('slate') },
      { token: 'number.json', foreground: bare('brass') },
      { token: 'keyword.json', foreground: bare('plum') },
      { token: 'delimiter', foreground: bare('ink-2') },
      { token: 'comment', foreground: bare('ink-2') },
    ],
    colors: {
      'editor.background': token('sheet'),
      'editor.foreground': token('ink'),
      'editorLineNumber.foreground': token('ink-2'),
      'editorLineNumber.activeForeground': token('ink'),
      'editorCursor.foreground': token('brass'),
      'editor.selectionBackground': token('brass-wash'),
      'editor.inactiveSelectionBackground': token('brass-wash'),
      'editor.lineHighlightBackground': token('paper'),
      'editor.lineHighlightBorder': token('paper'),
      'editorIndentGuide.background1': token('grid'),
      'editorIndentGuide.activeBackground1': token('hairline'),
      'editorBracketMatch.border': token('rule'),
      'editorBracketMatch.background': token('paper'),
      'editorError.foreground': token('oxide'),
      'editorWarning.foreground': token('plum'),
      'editorInfo.foreground': token('slate'),
      'editorWidget.background': token('sheet'),
      'editorWidget.foreground': token('ink'),
      'editorWidget.border': token('ink'),
      'editorHoverWidget.background': token('sheet'),
      'editorHoverWidget.foreground': token('ink'),
      'editorHoverWidget.border': token('ink'),
      'editorSuggestWidget.background': token('sheet'),
      'editorSuggestWidget.foreground': token('ink'),
      'editorSuggestWidget.border': token('ink'),
      'editorSuggestWidget.selectedBackground': token('brass-wash'),
      'editorSuggestWidget.selectedForeground': token('ink'),
      'editorSuggestWidget.highlightForeground': token('brass'),
      'editorSuggestWidget.focusHighlightForeground': token('brass'),
      'list.hoverBackground': token('paper'),
      'input.background': token('sheet'),
      'input.foreground': token('ink'),
      'input.border': token('rule'),
      'scrollbarSlider.background': `${token('rule')}55`,
      'scrollbarSlider.hoverBackground': `${token('rule')}88`,
      'scrollbarSlider.activeBackground': `${token('rule')}aa`,
      'scrollbar.shadow': token('hairline'),
      'widget.shadow': '#00000000',
      focusBorder: token('brass'),
      'editorBracketHighlight.unexpectedBracket.foreground': token('oxide'),
      'editorOverviewRuler.errorForeground': token('oxide'),
      'editorOverviewRuler.warningForeground': token('plum'),
      'editorBracketHighlight.foreground1': token('ink-2'),
      'editorBracketHighlight.foreground2': token('ink-2'),
      'editorBracketHighlight.foreground3': token('ink-2'),
    },
  })
  return name
}
