/*
 * There is one connection. Inside a transaction a query on the database itself waits for the transaction to end,
 * and the transaction waits for the query: the server stands still. So neither the callback of a transaction nor a
 * function that is given one may touch `db`.
 */

const MESSAGE =
  'Inside a transaction use the transaction alone: a query on the outer database would wait for it for ever.';

/** ESLint rule: no `db` within a `db.transaction().execute()` callback or a function that takes a `Trx`. */
export const noOuterDatabase = {
  meta: { type: 'problem', schema: [], messages: { outer: MESSAGE } },
  create(context) {
    /** Functions around the code at hand that run in a transaction. */
    const around = [];
    const enter = (node) => {
      if (isTransactionCallback(node) || node.params.some(isTransactionParameter)) around.push(node);
    };
    const leave = (node) => {
      if (around.at(-1) === node) around.pop();
    };
    return {
      ArrowFunctionExpression: enter,
      FunctionExpression: enter,
      FunctionDeclaration: enter,
      'ArrowFunctionExpression:exit': leave,
      'FunctionExpression:exit': leave,
      'FunctionDeclaration:exit': leave,
      MemberExpression(node) {
        if (around.length > 0 && isNamedDb(node)) context.report({ node, messageId: 'outer' });
      },
      Identifier(node) {
        const outermost = around[0];
        if (outermost === undefined || node.name !== 'db' || !isRead(node)) return;
        if (!isDeclaredWithin(context.sourceCode, node, outermost)) {
          context.report({ node, messageId: 'outer' });
        }
      },
    };
  },
};

/** Is this the function in `….transaction().execute(function)`? */
function isTransactionCallback(node) {
  const call = node.parent;
  if (call?.type !== 'CallExpression' || !call.arguments.includes(node)) return false;
  const { callee } = call;
  if (callee.type !== 'MemberExpression' || callee.property.name !== 'execute') return false;
  for (let begun = callee.object; begun?.type === 'CallExpression'; begun = begun.callee.object) {
    if (begun.callee.type === 'MemberExpression' && begun.callee.property.name === 'transaction') return true;
  }
  return false;
}

function isTransactionParameter(parameter) {
  const type = parameter.typeAnnotation?.typeAnnotation;
  return type?.type === 'TSTypeReference' && type.typeName.name === 'Trx';
}

function isNamedDb({ property, computed }) {
  return computed ? property.type === 'Literal' && property.value === 'db' : property.name === 'db';
}

/** A use of the variable, not the name of a property, a key or a declaration. */
function isRead(node) {
  const { parent } = node;
  if (parent.type === 'MemberExpression') return parent.object === node;
  if (parent.type === 'Property') return parent.value === node && parent.parent.type !== 'ObjectPattern';
  if (parent.type === 'VariableDeclarator') return parent.init === node;
  return !parent.type.startsWith('TS') && !(parent.params?.includes(node) ?? false);
}

function isDeclaredWithin(sourceCode, node, outermost) {
  for (let scope = sourceCode.getScope(node); scope !== null; scope = scope.upper) {
    const variable = scope.set.get('db');
    if (variable === undefined) continue;
    return variable.defs.some(({ node: { range } }) => isInside(range, outermost.range));
  }
  return false;
}

function isInside([start, end], [from, to]) {
  return start >= from && end <= to;
}
