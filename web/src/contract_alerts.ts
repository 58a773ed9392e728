// Alerts, their deliveries and the targets they go to, field for field as in /api/v1.

export type Severity = 'note' | 'warning' | 'urgent';

// As the Floor and a load carry them, worst first.
export interface AlertSummary {
  id: number;
  kind: string;
  severity: Severity;
  sentence: string;
  advice: string | null;
  since: string;
  acknowledged: boolean;
  shelved: boolean;
}
export interface FloorAlerts { active: number; unacknowledged: number; worst: Severity | null; newest_id: number | null; plant: AlertSummary[] }

export interface Alert {
  id: number;
  kind: string;
  severity: Severity;
  state: 'active' | 'past';
  furnace: string | null;
  furnace_name: string | null;
  load: number | null;
  load_name: string | null;
  item: string | null;
  sentence: string;
  advice: string | null;
  since: string;       // data time at which it began
  raised_at: string;
  last_seen: string;
  cleared_at: string | null;
  times: number;       // how often the condition came back within this alert
  acknowledged: { person: string; at: string } | null;
  shelved: { person: string; reason: string; until: string } | null;
  escalated: boolean;
  delivery: { waiting: number; delivered: number; stuck: number };
}
export interface AlertEvent { at: string; person: string | null; what: string; text: string }
export interface Delivery {
  target: string;
  event: string;
  state: 'waiting' | 'delivered' | 'stuck';
  attempts: number;
  next_try: string | null;
  delivered_at: string | null;
  error: string | null;
  key: string;
}
export interface AlertRecord extends Alert { events: AlertEvent[]; deliveries: Delivery[] }
export interface AlertsPage { alerts: Alert[]; next_cursor: string | number | null }

export interface Target {
  name: string;
  kind: 'webhook' | 'mail' | 'mqtt';
  where: string;       // host and path, without secrets
  routes: string;
  waiting: number;
  stuck: number;
  last_delivered_at: string | null;
  last_error: string | null;
}
