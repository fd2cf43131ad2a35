/** What the report screen was asked for from elsewhere: the menu's command, or its keys, open the freezing of an edition. */
class Desk {
  freezing = $state(false);
  /** Who writes notes, as typed in this window; asked for once, and never kept. */
  writer = $state('');
}

export const reportDesk = new Desk();
