import { type EnvironmentProviders, inject, provideEnvironmentInitializer } from '@angular/core';
import { MatIconRegistry } from '@angular/material/icon';
import { DomSanitizer } from '@angular/platform-browser';
import account from './icons/account.svg';
import add from './icons/add.svg';
import arrowDownward from './icons/arrow-downward.svg';
import arrowForward from './icons/arrow-forward.svg';
import arrowUpward from './icons/arrow-upward.svg';
import bolt from './icons/bolt.svg';
import build from './icons/build.svg';
import call from './icons/call.svg';
import cancel from './icons/cancel.svg';
import check from './icons/check.svg';
import checkCircle from './icons/check-circle.svg';
import chevronDown from './icons/chevron-down.svg';
import chevronLeft from './icons/chevron-left.svg';
import chevronRight from './icons/chevron-right.svg';
import chevronUp from './icons/chevron-up.svg';
import close from './icons/close.svg';
import cloudOff from './icons/cloud-off.svg';
import contentCopy from './icons/content-copy.svg';
import contrast from './icons/contrast.svg';
import deleteIcon from './icons/delete.svg';
import download from './icons/download.svg';
import drain from './icons/drain.svg';
import draw from './icons/draw.svg';
import edit from './icons/edit.svg';
import error from './icons/error.svg';
import filterList from './icons/filter-list.svg';
import group from './icons/group.svg';
import help from './icons/help.svg';
import hourglassTop from './icons/hourglass-top.svg';
import info from './icons/info.svg';
import keyboard from './icons/keyboard.svg';
import kitchen from './icons/kitchen.svg';
import layers from './icons/layers.svg';
import list from './icons/list.svg';
import locationOn from './icons/location-on.svg';
import lock from './icons/lock.svg';
import lockOpen from './icons/lock-open.svg';
import logout from './icons/logout.svg';
import map from './icons/map.svg';
import medication from './icons/medication.svg';
import menu from './icons/menu.svg';
import message from './icons/message.svg';
import moreVert from './icons/more-vert.svg';
import myLocation from './icons/my-location.svg';
import navigation from './icons/navigation.svg';
import nightLog from './icons/night-log.svg';
import none from './icons/none.svg';
import office from './icons/office.svg';
import password from './icons/password.svg';
import pause from './icons/pause.svg';
import person from './icons/person.svg';
import pharmacy from './icons/pharmacy.svg';
import phoneInTalk from './icons/phone-in-talk.svg';
import playArrow from './icons/play-arrow.svg';
import printIcon from './icons/print.svg';
import radioButtonUnchecked from './icons/radio-button-unchecked.svg';
import refresh from './icons/refresh.svg';
import route from './icons/route.svg';
import schedule from './icons/schedule.svg';
import search from './icons/search.svg';
import send from './icons/send.svg';
import storefront from './icons/storefront.svg';
import swapHoriz from './icons/swap-horiz.svg';
import sync from './icons/sync.svg';
import technician from './icons/technician.svg';
import thermometer from './icons/thermometer.svg';
import timer from './icons/timer.svg';
import undo from './icons/undo.svg';
import upload from './icons/upload.svg';
import van from './icons/van.svg';
import visibility from './icons/visibility.svg';
import visibilityOff from './icons/visibility-off.svg';
import warning from './icons/warning.svg';
import waterDrop from './icons/water-drop.svg';

/**
 * Every icon of the product, drawn from files of our own so that no font or network is needed:
 * `<mat-icon svgIcon="call" />`. Words stand beside an icon unless the control has an aria-label.
 */
const ICONS = {
  account,
  add,
  'arrow-downward': arrowDownward,
  'arrow-forward': arrowForward,
  'arrow-upward': arrowUpward,
  bolt,
  build,
  call,
  cancel,
  check,
  'check-circle': checkCircle,
  'chevron-down': chevronDown,
  'chevron-left': chevronLeft,
  'chevron-right': chevronRight,
  'chevron-up': chevronUp,
  close,
  'cloud-off': cloudOff,
  'content-copy': contentCopy,
  contrast,
  delete: deleteIcon,
  download,
  drain,
  draw,
  edit,
  error,
  'filter-list': filterList,
  group,
  help,
  'hourglass-top': hourglassTop,
  info,
  keyboard,
  kitchen,
  layers,
  list,
  'location-on': locationOn,
  lock,
  'lock-open': lockOpen,
  logout,
  map,
  medication,
  menu,
  message,
  'more-vert': moreVert,
  'my-location': myLocation,
  navigation,
  'night-log': nightLog,
  /** Nothing, as wide as an icon. */
  none,
  office,
  password,
  pause,
  person,
  pharmacy,
  'phone-in-talk': phoneInTalk,
  'play-arrow': playArrow,
  print: printIcon,
  'radio-button-unchecked': radioButtonUnchecked,
  refresh,
  route,
  schedule,
  search,
  send,
  storefront,
  'swap-horiz': swapHoriz,
  sync,
  technician,
  thermometer,
  timer,
  undo,
  upload,
  van,
  visibility,
  'visibility-off': visibilityOff,
  warning,
  'water-drop': waterDrop,
} as const;

export type IconName = keyof typeof ICONS;

export const provideIcons = (): EnvironmentProviders =>
  provideEnvironmentInitializer(() => {
    const registry = inject(MatIconRegistry);
    const sanitizer = inject(DomSanitizer);
    for (const [name, svg] of Object.entries(ICONS)) {
      // Safe: the drawings are part of this program, not of anything that was sent.
      registry.addSvgIconLiteral(name, sanitizer.bypassSecurityTrustHtml(svg));
    }
  });
