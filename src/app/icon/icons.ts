import menu from '@material-symbols/svg-300/sharp/menu.svg';
import menuBook from '@material-symbols/svg-300/sharp/menu_book.svg';
import contrast from '@material-symbols/svg-300/sharp/contrast.svg';
import functionSymbol from '@material-symbols/svg-300/sharp/function.svg';
import finance from '@material-symbols/svg-300/sharp/finance.svg';
import key from '@material-symbols/svg-300/sharp/key.svg';
import logout from '@material-symbols/svg-300/sharp/logout.svg';
import download from '@material-symbols/svg-300/sharp/download.svg';
import table from '@material-symbols/svg-300/sharp/table.svg';
import image from '@material-symbols/svg-300/sharp/image.svg';
import contentCopy from '@material-symbols/svg-300/sharp/content_copy.svg';
import add from '@material-symbols/svg-300/sharp/add.svg';
import search from '@material-symbols/svg-300/sharp/search.svg';
import moreVert from '@material-symbols/svg-300/sharp/more_vert.svg';
import close from '@material-symbols/svg-300/sharp/close.svg';
import check from '@material-symbols/svg-300/sharp/check.svg';
import playArrow from '@material-symbols/svg-300/sharp/play_arrow.svg';
import stop from '@material-symbols/svg-300/sharp/stop.svg';
import keyboardArrowDown from '@material-symbols/svg-300/sharp/keyboard_arrow_down.svg';
import visibility from '@material-symbols/svg-300/sharp/visibility.svg';
import visibilityOff from '@material-symbols/svg-300/sharp/visibility_off.svg';
import autorenew from '@material-symbols/svg-300/sharp/autorenew.svg';
import block from '@material-symbols/svg-300/sharp/block.svg';
import info from '@material-symbols/svg-300/sharp/info.svg';
import chevronLeft from '@material-symbols/svg-300/sharp/chevron_left.svg';
import chevronRight from '@material-symbols/svg-300/sharp/chevron_right.svg';
import lightMode from '@material-symbols/svg-300/sharp/light_mode.svg';
import darkMode from '@material-symbols/svg-300/sharp/dark_mode.svg';
import computer from '@material-symbols/svg-300/sharp/computer.svg';
import libraryBooks from '@material-symbols/svg-300/sharp/library_books.svg';
import login from '@material-symbols/svg-300/sharp/login.svg';
import draft from '@material-symbols/svg-300/sharp/draft.svg';

/** The drawing inside an icon file: each of them is one path. */
const pathOf = (markup: string): string => / d="([^"]+)"/.exec(markup)?.[1] ?? '';

export const icons = {
  menu: pathOf(menu),
  'menu-book': pathOf(menuBook),
  contrast: pathOf(contrast),
  function: pathOf(functionSymbol),
  finance: pathOf(finance),
  key: pathOf(key),
  logout: pathOf(logout),
  download: pathOf(download),
  table: pathOf(table),
  image: pathOf(image),
  'content-copy': pathOf(contentCopy),
  add: pathOf(add),
  search: pathOf(search),
  'more-vert': pathOf(moreVert),
  close: pathOf(close),
  check: pathOf(check),
  'play-arrow': pathOf(playArrow),
  stop: pathOf(stop),
  'keyboard-arrow-down': pathOf(keyboardArrowDown),
  visibility: pathOf(visibility),
  'visibility-off': pathOf(visibilityOff),
  autorenew: pathOf(autorenew),
  block: pathOf(block),
  info: pathOf(info),
  'chevron-left': pathOf(chevronLeft),
  'chevron-right': pathOf(chevronRight),
  'light-mode': pathOf(lightMode),
  'dark-mode': pathOf(darkMode),
  computer: pathOf(computer),
  'library-books': pathOf(libraryBooks),
  login: pathOf(login),
  draft: pathOf(draft),
} as const;

export type IconName = keyof typeof icons;
