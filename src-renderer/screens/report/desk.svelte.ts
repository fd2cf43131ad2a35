/** What the report screen was asked for from elsewhere: the menu's command, or its keys, open the freezing of an edition. */
class Desk {
  freezing = $state(false);
}

export const reportDesk = new Desk();
