import { plain } from './plain-text';
import type { ColumnRole } from './column-map';

/**
 * The words of a column title: "CallBack#" and "call-back no." both give "call back no".
 */
export function headerWords(header: string): string {
  return plain(
    header
      .replace(/([a-z])([A-Z])/g, '$1 $2')
      .replace(/([A-Za-z])(\d)/g, '$1 $2')
      .replace(/#/g, ' no ')
      .replace(/&/g, ' and '),
  )
    .replace(/[^a-z0-9]+/g, ' ')
    .trim();
}

/** How well a title fits each role, 0 to 1; roles that it does not fit are absent. */
export function rolesOfHeader(header: string): ReadonlyMap<ColumnRole, number> {
  const words = headerWords(header);
  const scores = new Map<ColumnRole, number>();
  if (!words) return scores;
  for (const [role, score, pattern] of TITLES) {
    if (pattern.test(words)) scores.set(role, Math.max(scores.get(role) ?? 0, score));
  }
  return scores;
}

const WHO =
  '(?:caller|callers|cust|customer|client|clients|contact|member|resident|subscriber|patient|cllr|clr|clnt)';
const CALL = '(?:call|cll|msg|message|ticket|log|record|rec|entry|in|inbound|svc|service|event)';
const NO = '(?:no|nr|num|number|nbr|id|ref)';
const PHONE =
  '(?:phone|phones|ph|phn|fone|tel|tele|telephone|telefono|tele no|cell|mobile|numero|movil|celular)';
const OUT = '(?:out|off|lost|failed|went|went out|went off|down|outage|cut|fail|loss)';
const POWER = '(?:power|pwr|elec|electric|electricity|current|lights|service|luz|utility)';
const AT =
  '(?: ?(?:at|since|time|tm|date|dt|from|start|began|begin|began at|on|dttm|date time|when|approx|about|est))*';

const t = (
  role: ColumnRole,
  score: number,
  source: string,
): readonly [ColumnRole, number, RegExp] => [role, score, new RegExp(`^(?:${source})$`)];
const part = (
  role: ColumnRole,
  score: number,
  source: string,
): readonly [ColumnRole, number, RegExp] => [role, score, new RegExp(`\\b(?:${source})\\b`)];

const TITLES: readonly (readonly [ColumnRole, number, RegExp])[] = [
  t(
    'callId',
    1,
    `(?:${CALL}|job|case|incident|wo|work order|tkt|control|conf|confirmation|order|account|acct|line|item|seq|serial|row|folio) ${NO}`,
  ),
  t('callId', 0.9, `id|${NO}|seq|sequence|rec|record|ticket|tkt|row|item|case|uid|uuid|guid|n|ref`),
  t('callId', 0.5, `line|call|entry|log`),

  t(
    'receivedAt',
    1,
    `(?:date|dt|day) (?:and |of |o )?(?:time|tm)(?: (?:received|recd|rcvd|rec d|of call|called|taken|in|call))?|(?:time|tm) (?:and )?date|date ?time|timestamp|time ?stamp|stamp|when|dttm|fecha (?:y )?hora|(?:received|recd|rcvd|rec d|taken|called|logged|call|msg|created|entered|start|opened|answered|recorded) (?:at|on|when|timestamp|date (?:and )?time|datetime|dttm|stamp|ts|dt tm)|call (?:date (?:and )?time|datetime)`,
  ),
  t(
    'receivedAt',
    0.8,
    `received|recd|rcvd|rec d|rec vd|logged|called|call in|taken|(?:msg|message) (?:taken|received|recd|rcvd|in)|created|start|entered|in|recibido|call recd|call received`,
  ),
  t(
    'receivedAt',
    0.55,
    `${CALL}? ?(?:date|time|dt|tm|day|fecha|hora)|time (?:in|of call|called|recd|received|taken)|date (?:in|of call|called|recd|received)`,
  ),
  t(
    'receivedDate',
    1,
    `${CALL}? ?(?:date|dt|day|fecha)|date (?:of call|called|in|recd|received|rcvd|taken|rec d|of msg|of message)|(?:recd|received|rcvd|taken|rec d|logged|start|entry|msg) (?:date|dt|day)|call day|shift (?:date|dt|day)|service date|fecha(?: de llamada)?`,
  ),
  t('receivedDate', 0.4, `received|recd|rcvd|taken|(?:msg|message) taken`),
  t(
    'receivedTime',
    1,
    `${CALL}? ?(?:time|tm|hora|clock)|time (?:of call|called|in|recd|received|rcvd|taken|rec d|of msg|of message|stamp)|(?:recd|received|rcvd|taken|rec d|logged|start|entry|msg|call) (?:time|tm|at|hr|hrs)|hour|hr|hrs|uhr(?:zeit)?|heure|hora(?: de llamada)?|called at|at`,
  ),
  t('receivedTime', 0.75, `received|recd|rcvd|taken|called|(?:msg|message) taken|in|start|logged`),

  t(
    'callerName',
    1,
    `${WHO}|${WHO} (?:s )?(?:name|nm|full name)|name|full name|nombre(?: completo| del cliente)?|nm|name of caller|who|who called|from|called by|party|calling party|person|home ?owner|tenant|owner|occupant|household|contact name|contact person|caller name|customer name|name business|name company|last first|lastname firstname|last name first name|first last|name last first|first and last(?: name)?|cliente|ask for`,
  ),
  part('callerName', 0.6, `name|nombre|caller|customer`),
  t(
    'firstName',
    1,
    `(?:${WHO} )?(?:first|fname|f name|first name|given|given name|forename|frst|first nm|1 st name|nombre de pila)`,
  ),
  t(
    'lastName',
    1,
    `(?:${WHO} )?(?:last|lname|l name|last name|surname|family|family name|last nm|sur name|apellidos?)`,
  ),
  t(
    'business',
    1,
    `business|business name|company|company name|firm|org|organization|organisation|establishment|store|restaurant|biz|biz name|co name|dba`,
  ),

  t(
    'phone',
    1,
    `(?:${WHO} |home |primary |main |day |daytime |best |return |their |contact |svc )?${PHONE}(?: ?${NO})?(?: 1)?|(?:call ?back|cb|return call|return|c b|callbk|cbk|clbk|rtn)(?: ?(?:${NO}|${PHONE}|ph no|phone no|tel no|at))*|${PHONE} (?:home|main|primary|day|call ?back|given)|best ${NO}(?: to reach)?|contact ${NO}|reach at|phone of caller|number to call(?: back)?|reachable at|number given|(?:no|number) (?:to )?call(?: back)?`,
  ),
  t(
    'phone',
    0.7,
    `cli|ani|caller ?id|cid|clid|caller ${NO}|calling ${NO}|contact|contact info|number|no|nbr|num|from|caller|inbound ${NO}|from ${NO}`,
  ),
  part('phone', 0.6, `phone|tel|telephone|call ?back|telefono|mobile`),
  t(
    'altPhone',
    1,
    `(?:alt|alternate|alternative|other|second|secondary|2 nd|2nd|work|wk|cell|mobile|spouse|neighbor|neighbour|evening|night|emergency|backup|addl|additional|landline|home) ?(?:contact )?(?:${PHONE}|${NO}|contact)(?: ?${NO})?|${PHONE} ?(?:2|alt|other|work|cell|mobile)(?: ?${NO})?|alt|cell|mobile|cli|ani|caller ?id(?: ?${NO})?|cid|clid|calling ${NO}|from ${NO}|caller ?id ${PHONE}|displayed ${NO}`,
  ),

  t(
    'address',
    1,
    `(?:(?:svc|service|serv|street|home|site|house|job|premises?|install|unit|cust|customer|caller|full|physical|mailing|location|visit|property) )?(?:address|addr|adr|adress|addrs|ad|domicilio|direccion)(?: (?:line|ln))?(?: 1)?(?: of (?:unit|service|home|appliance))?|location|loc|where|premises?|site|residence|(?:svc|service|serv|job) (?:loc|location|site)|direccion|domicilio|ubicacion|address (?:full|1|line 1|of service)|lives at|place|where at|property`,
  ),
  t(
    'address',
    0.7,
    `(?:addr|address|adr)(?: (?:line|ln))? [23]|addr cont|address (?:cont|2 line)|address unit|street (?:and )?(?:no|number)|street|house`,
  ),
  part('address', 0.6, `address|addr|direccion`),
  t(
    'streetNumber',
    1,
    `(?:house|hse|hs|street|st|str|bldg|building|addr|address|civic|premise|stno|h) ?(?:${NO}|n)|hno|house|hse|stno|st no|no de casa|numero de casa`,
  ),
  t('streetNumber', 0.6, `number|no|num|nbr|nr|numero|bldg`),
  t('street', 1, `(?:street|st|str|road|rd) ?(?:name|nm)?|street address|strt|rd name|calle`),
  t(
    'unitNo',
    1,
    `(?:apt|apartment|apmt|suite|ste|lot|flat|rm|room|trailer|trlr|space|spc|apto|depto)(?: ?(?:${NO}|lot|suite|ste|unit|apt|rm|room|trlr))*|unit ?(?:no|num|number|nbr|apt|lot)|(?:addr|address|adr)(?: (?:line|ln))? 2|sub ?unit`,
  ),
  t('unitNo', 0.7, `unit`),
  t(
    'city',
    1,
    `(?:svc |service |cust )?(?:city|town|twn|cty|municipality|community|locality|village|township|twp|place|ciudad|pueblo|area|city town|town city|city village)(?: name)?`,
  ),
  t('city', 0.5, `city (?:state )?(?:and )?(?:state )?(?:zip|st zip)?|csz`),
  t('state', 1, `state|prov|province|estado|st abbr`),
  t('state', 0.7, `st`),
  t(
    'postcode',
    1,
    `(?:svc |service )?(?:zip|zip ?code|zip ?cd|postal|postal code|post ?code|pc|zip 5|zip 4|zip plus 4|codigo postal|cp)`,
  ),

  t(
    'unitKind',
    1,
    `(?:(?:type of |kind of |which |what )?(?:appl|appliance|appliances|applnc|equip|equipment|eqp|unit type|unit kind|units|device|product|machine|electrodomestico|aparato|equipo)(?: ?(?:type|affected|down|desc|description|s|name|involved|in question))?|(?:fridge|frig|refrig|refrigerator|ref|freezer|frzr|frz)(?: (?:or|and|fridge|frig|refrig|refrigerator|freezer|frzr|frz|deep|chest|type|unit|other|which))*|what (?:unit|appliance|is down|broke)|item type|which unit|type of unit|unit affected|unit s affected|unit s)`,
  ),
  t('unitKind', 0.6, `unit|item|type|what|what for|asset|category|cat|kind|service type|call type`),
  t('unitKind', 0.9, `(?:unit|appl|appliance|equip|equipment|item)s? ?[1-4](?: type)?`),
  part('unitKind', 0.6, `appliances?|appl|equip|equipment`),

  t(
    'remarks',
    1,
    `msg|message|messages|msg text|message text|text|remarks?|rmks?|rmrks|notes?|nts|comments?|cmt|cmnts?|details?|description|desc|descr|problem|prob|prblm|issue|complaint|cmplt|symptoms?|trouble|reason|reason for call|nature|nature of (?:call|problem)|memo|narrative|info|information|mensaje|notas?|observaciones|comentarios?|problema|what s wrong|whats wrong|what happened|(?:operator|agent|call|dispatch|special|svc|service|customer|caller|other|add l|addl|additional|misc) ?(?:notes?|remarks?|comments?|details?|info|instructions?|message|instr)|special instr(?:uctions)?|regarding|re|problem desc(?:ription)?|problem (?:details?|reported|notes?|remarks)|issue (?:desc|description|notes?)|caller said|said|summary|body|complaint details?|subject|fault|malfunction|inst|instructions?|message (?:taken|body|details?)`,
  ),
  t('remarks', 0.6, `(?:msg|message) taken|status notes?|misc|other|taken`),
  part('remarks', 0.7, `notes?|remarks?|comments?|message|problem|mensaje`),

  t(
    'powerOutAt',
    1,
    `(?:${POWER} )?${OUT}${AT} ?(?:${POWER})?${AT}|${POWER} (?:is )?${OUT}${AT}|(?:out|off|down|no ${POWER}|without ${POWER}|w o ${POWER}) since|since|${POWER} ${OUT}|(?:time|tm|when|date) ${POWER} ${OUT}|lost ${POWER}${AT}|outage (?:start|began|begin|from|time|since|date)(?: ?(?:time|date|at))?|${POWER} loss${AT}|sin luz desde|se fue la luz|outage|no ${POWER}${AT}`,
  ),
  part(
    'powerOutAt',
    0.7,
    `(?:power|pwr) (?:out|off|lost|loss|failed|went|down)|out since|outage start`,
  ),
  t(
    'powerBackAt',
    1,
    `(?:${POWER} )?(?:back|restored|returned|on|back on|came back|return|restore|resumed|restoration|back up|on again)${AT}|${POWER} (?:is )?(?:back|restored|on)${AT}|outage (?:end|ended|to|until|over)${AT}|(?:time|tm|when) (?:${POWER} )?(?:back|restored|back on)|volvio(?: la luz)?|back (?:on|at|up)${AT}`,
  ),
  part('powerBackAt', 0.75, `(?:power|pwr) (?:back|restored|on|returned)|back on|restored`),
  t(
    'hoursOut',
    1,
    `(?:hours?|hrs?)(?: ?(?:out|off|down|warm|without|w o|no|since|of|without power|w o power|no power|dead|outage))*|how long(?: ?(?:out|off|down|w o|without|power|dead|has it been))*|(?:outage|out|off|down ?time|down) (?:hours?|hrs?|duration|length)|duration (?:of )?(?:outage|out)|horas(?: sin luz)?`,
  ),

  t(
    'contents',
    1,
    `contents?|food|foods|what s in(?: it| side)?|whats in(?: it|side)?|inside|stock|stored|food in(?:side)?|food at risk|at risk|contenido|comida|food items|perishables?|items inside`,
  ),
  t(
    'medicine',
    1,
    `(?:any )?(?:meds?|medicines?|medical|medications?|rx|insulin|insulin meds|meds insulin|prescriptions?|medicinas?|medicamentos?|vaccines?)(?: ?(?:in|inside|fridge|in fridge|yn|y n|y|n|needs?|flag|info|item|items|at risk|stored|or|and|insulin|milk|breast milk|refrigerated|refrig|present|on site|insulin|need|concern|concerns|alert|issue))*|insulin (?:or )?(?:meds?|medicine|milk)?(?: y n)?|med flag`,
  ),
  part('medicine', 0.8, `insulin|meds|medicine|medication`),
  t(
    'danger',
    1,
    `danger|hazards?|safety|safety (?:issue|concern|flag|hazards?|y n)s?|smoke(?: ?(?:or|and|fire|sparks?|burning|smell|y n|water|burn))*|(?:smoke|sparks?|burning|fire) (?:y n|flag)|unsafe|peligro`,
  ),
  t(
    'language',
    1,
    `lang|language|languages?|lng|idioma|spanish(?: y n)?|sp|pref(?:erred)? lang(?:uage)?|language pref|spoken|interpreter|lengua`,
  ),
  t(
    'detail',
    0.9,
    `temp|temperature|make|brand|model|age|year|size|cu ?ft|full|how full|fill|email|e mail|county|cross st(?:reet)?|cross street|landmark|gate code|access|directions?|pets?|availability|best time|when home|warranty|map|zone|territory|priority|prio|urgent|urgency|urg|pri|severity|level|emergency|emer|subdivision|complex|rental|landlord|bldg name|building name|floor|owner or renter|account name`,
  ),
  t(
    'ignore',
    1,
    `op|oper|opr|operator|operador|agent|agt|rep|csr|initials?|inits?|ini|taken by|tkn by|taker|call taker|attendant|by|user|clerk|staff|recorded by|logged by|answered by|entered by|handled by|tsr|emp|employee|station|desk|seat|queue|que|skill|line ?no|trunk|dnis|dialed|account code|acct code|status|stat|st code|disp|dispo|disposition|delivered|dlvd|delivery|sent|read|ack|acked|duration|dur|length|len|talk time|hold time|hold|wait|ring|rings|secs?|seconds|min|mins|minutes|client acct|acct|account|billing|bill code|shift|team|result|outcome|call length|end|end time|ended|hang ?up|time out|closed|completed|relayed|relayed to|paged|dispatched|dispatched to|on call|x|file|recording|audio|url|link|type code`,
  ),
  t(
    'ignore',
    0.6,
    `taken|received|recd|logged|entered|answered|to|destination|did|called (?:party|no)`,
  ),
  part('ignore', 0.6, `operator|agent|initials|taken by|duration`),
];
