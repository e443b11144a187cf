import { withAccess } from '@/server/access/route';
import { answerQuestion, answerSchema } from '@/server/questions/service';

export const POST = withAccess({ action: 'question.answer', body: answerSchema }, ({ scope, body }) =>
  answerQuestion(scope, body.text),
);
