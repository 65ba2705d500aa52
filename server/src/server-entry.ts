import { serve } from './server-node.ts'

serve()
