import { UserError } from '../errors.js';
import type { Operation } from '../operations/types.js';

/**
 * Operations in an order in which every input (an optional one too) is made before it is used; where that leaves a
 * choice, the order of the list stands, but a document comes after everything that it may tell of. A ring of inputs, or two operations that make the same role, is refused.
 */
export function orderOperations(operations: readonly Operation[]): Operation[] {
  const makers = new Map<string, Operation>();
  for (const operation of operations) {
    for (const role of Object.keys(operation.outputs)) {
      const other = makers.get(role);
      if (other) throw invalid(operation, `the output "${role}", which "${other.id}" makes already`, 'a role of its own for each output');
      makers.set(role, operation);
    }
  }
  const ordered: Operation[] = [];
  const open = new Set<Operation>();
  const visit = (operation: Operation): void => {
    if (ordered.includes(operation)) return;
    if (open.has(operation)) throw invalid(operation, 'an input that depends on its own output', 'inputs made by earlier operations');
    open.add(operation);
    for (const role of Object.keys(operation.inputs)) {
      const maker = makers.get(role);
      if (maker) visit(maker);
    }
    open.delete(operation);
    ordered.push(operation);
  };
  const tells = ({ outputs }: Operation): boolean => Object.values(outputs).some(({ form }) => form === 'html');
  [...operations.filter((operation) => !tells(operation)), ...operations.filter(tells)].forEach(visit);
  return ordered;
}

function invalid(operation: Operation, found: string, wanted: string): UserError {
  return new UserError({ code: 'operation_invalid', where: `operation "${operation.id}"`, found, wanted });
}
