export {
  type AttemptState,
  attemptByKey,
  type CheckoutAttempt,
  type CheckoutPurpose,
  latestAttempt,
} from './checkout-repository.ts';
export {
  type EventHandler,
  type EventHandlers,
  handleDueEvents,
  PAYMENT_EVENTS,
  takeWebhook,
} from './handle-events.ts';
export { paymentsRoutes } from './payments-routes.ts';
export { receiptOf, receiptsOfCourse, receiptsOfDay } from './receipts-read.ts';
export { type PaymentDeps, reconcileCheckout } from './reconcile-checkout.ts';
export { type ReceiptInput, type RecordedReceipt, recordReceipt } from './record-receipt.ts';
export { startCheckout } from './start-checkout.ts';
export { sweepCheckouts, sweepEvents } from './sweep-checkouts.ts';
export { takeDeskPayment } from './take-payment.ts';
export { voidDeskReceipt } from './void-receipt.ts';
