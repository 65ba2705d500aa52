/** A new lattice file: which lattice it is of is asked first, so that its skeleton asks for exactly what that needs. */
import {
  commands,
  type ExtensionContext,
  l10n,
  type QuickPickItem,
  QuickPickItemKind,
  SnippetString,
  window,
  workspace,
} from 'vscode'
import { SKELETON_LIST, type SkeletonOffer, type SkeletonsResult } from '../../server/src/protocol.ts'
import type { Server } from './server.ts'

interface SkeletonItem extends QuickPickItem {
  readonly skeleton?: SkeletonOffer
}

/** The command may be given the id of a skeleton, `tI` say; then it does not ask. */
export function registerNewFile(context: ExtensionContext, server: Server): void {
  const newFile = async (id?: unknown): Promise<void> => {
    const { skeletons } = await server.request<SkeletonsResult>(SKELETON_LIST, {})
    const skeleton = skeletons.find(each => each.id === id) ?? (await pick(skeletons))
    if (!skeleton) return
    const document = await workspace.openTextDocument({ language: 'braggline' })
    const editor = await window.showTextDocument(document)
    await editor.insertSnippet(new SnippetString(skeleton.text))
  }
  context.subscriptions.push(commands.registerCommand('braggline.newFile', newFile))
}

async function pick(skeletons: readonly SkeletonOffer[]): Promise<SkeletonOffer | undefined> {
  const groups = new Map<string, SkeletonItem[]>()
  for (const skeleton of skeletons) {
    const { id, name, system, asks, group } = skeleton
    const items = groups.get(group) ?? []
    groups.set(group, items)
    items.push({
      label: name,
      description: name.toLowerCase().includes(system) ? `${id} · ${asks}` : `${id} · ${system} · ${asks}`,
      skeleton,
    })
  }
  const items = [...groups].flatMap(([label, each]): SkeletonItem[] => [
    { label, kind: QuickPickItemKind.Separator },
    ...each,
  ])
  const title = l10n.t('New Lattice File')
  const placeHolder = l10n.t('Which lattice: its type, or vectors')
  const picked = await window.showQuickPick(items, { title, placeHolder, matchOnDescription: true })
  return picked?.skeleton
}
