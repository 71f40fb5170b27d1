/**
 * A raw query must pass `type`: without it Sequelize 6 and this connector throw
 * "Cannot delete property 'meta'", or give rows in a shape that depends on the statement.
 */
module.exports = {
  meta: { type: 'problem', schema: [], messages: { untyped: 'Pass `type` to a raw query.' } },
  create(context) {
    return {
      CallExpression(node) {
        const { callee } = node;
        if (callee.type !== 'MemberExpression' || callee.property.name !== 'query') return;
        if (!/sequelize/i.test(context.sourceCode.getText(callee.object))) return;

        const [, options] = node.arguments;
        const isTyped =
          options?.type === 'ObjectExpression' &&
          options.properties.some(
            (property) => property.type === 'Property' && property.key.name === 'type',
          );
        if (!isTyped) context.report({ node, messageId: 'untyped' });
      },
    };
  },
};
